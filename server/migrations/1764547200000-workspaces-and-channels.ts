import type { MigrationInterface, QueryRunner } from 'typeorm'

const up = [
  `CREATE TABLE "users" (
    "id" text PRIMARY KEY NOT NULL,
    "email" text NOT NULL,
    "name" text NOT NULL,
    "passwordHash" text NOT NULL,
    "disabledAt" text,
    "createdAt" text NOT NULL,
    CONSTRAINT "users_email" UNIQUE ("email")
  )`,
  `CREATE TABLE "workspaces" (
    "id" text PRIMARY KEY NOT NULL,
    "name" text NOT NULL,
    "prefix" text NOT NULL,
    "createdAt" text NOT NULL
  )`,
  `CREATE TABLE "memberships" (
    "workspaceId" text NOT NULL,
    "userId" text NOT NULL,
    "roles" text NOT NULL,
    "createdAt" text NOT NULL,
    CONSTRAINT "memberships_workspace" FOREIGN KEY ("workspaceId") REFERENCES "workspaces" ("id") ON DELETE CASCADE ON UPDATE NO ACTION,
    CONSTRAINT "memberships_user" FOREIGN KEY ("userId") REFERENCES "users" ("id") ON DELETE CASCADE ON UPDATE NO ACTION,
    PRIMARY KEY ("workspaceId", "userId")
  )`,
  `CREATE INDEX "memberships_by_user" ON "memberships" ("userId")`,
  `CREATE TABLE "projects" (
    "id" text PRIMARY KEY NOT NULL,
    "workspaceId" text NOT NULL,
    "name" text NOT NULL,
    "board" text NOT NULL,
    "description" text NOT NULL,
    "version" integer NOT NULL,
    "createdAt" text NOT NULL,
    "updatedAt" text NOT NULL,
    "deletedAt" text,
    CONSTRAINT "projects_workspace" FOREIGN KEY ("workspaceId") REFERENCES "workspaces" ("id") ON DELETE CASCADE ON UPDATE NO ACTION
  )`,
  `CREATE INDEX "projects_by_workspace" ON "projects" ("workspaceId")`,
  `CREATE TABLE "channels" (
    "id" text PRIMARY KEY NOT NULL,
    "workspaceId" text NOT NULL,
    "projectId" text NOT NULL,
    "number" integer NOT NULL,
    "position" integer NOT NULL,
    "group" text NOT NULL,
    "document" text NOT NULL,
    "version" integer NOT NULL,
    "createdAt" text NOT NULL,
    "updatedAt" text NOT NULL,
    "updatedById" text,
    "deletedAt" text,
    CONSTRAINT "channels_workspace" FOREIGN KEY ("workspaceId") REFERENCES "workspaces" ("id") ON DELETE CASCADE ON UPDATE NO ACTION,
    CONSTRAINT "channels_project" FOREIGN KEY ("projectId") REFERENCES "projects" ("id") ON DELETE CASCADE ON UPDATE NO ACTION,
    CONSTRAINT "channels_updated_by" FOREIGN KEY ("updatedById") REFERENCES "users" ("id") ON DELETE SET NULL ON UPDATE NO ACTION
  )`,
  `CREATE INDEX "channels_by_workspace" ON "channels" ("workspaceId")`,
  `CREATE INDEX "channels_by_project" ON "channels" ("projectId", "position")`,
  `CREATE UNIQUE INDEX "channels_number" ON "channels" ("projectId", "number") WHERE "deletedAt" IS NULL`,
]

const tables = ['channels', 'projects', 'memberships', 'workspaces', 'users']

export class WorkspacesAndChannels1764547200000 implements MigrationInterface {
  name = 'WorkspacesAndChannels1764547200000'

  async up(runner: QueryRunner): Promise<void> {
    for (const statement of up) await runner.query(statement)
  }

  async down(runner: QueryRunner): Promise<void> {
    for (const table of tables) await runner.dropTable(table)
  }
}
