import type { FC } from 'react'
import { usePlanner } from '../planner-context.tsx'
import type { StepId } from '../words/steps.ts'
import { ConverterStep } from './converter-step.tsx'
import { ErrorsStep } from './errors-step.tsx'
import { FilterStep } from './filter-step.tsx'
import { MeasurandStep } from './measurand-step.tsx'
import { PartsStep } from './parts-step.tsx'
import { ReviewStep } from './review-step.tsx'
import { SensorStep } from './sensor-step.tsx'
import { StagesStep } from './stages-step.tsx'
import { WholeJob } from './whole-job.tsx'

const forms: Record<StepId, FC> = {
  measurand: MeasurandStep,
  sensor: SensorStep,
  converter: ConverterStep,
  stages: StagesStep,
  parts: PartsStep,
  filter: FilterStep,
  errors: ErrorsStep,
  review: ReviewStep,
}

/** The fields of the present step; on the front page the whole job in one sentence. */
export function StepForm() {
  const { step } = usePlanner()
  const Form = step ? forms[step] : WholeJob
  return <Form />
}
