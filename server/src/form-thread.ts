/** Fills forms in a thread of its own, which is a bundle beside the caller's: it can be ended in the middle. */
import { join } from 'node:path'
import { Worker } from 'node:worker_threads'
import { type FillForm, FORM_LIMITS, type FormJob, type FormOutcome } from './exchange/forms/form.ts'

/** The form looks at the time itself between two steps; a step that does not end is ended from here, in ms later. */
const GRACE_MS = 2_000
/** A list of as many k-points as are allowed takes a fifth of it. */
const MEMORY_MB = 1_024

export const fillFormInThread: FillForm = job =>
  new Promise<FormOutcome>(resolve => {
    const worker = new Worker(join(__dirname, 'form-worker.js'), {
      workerData: job,
      resourceLimits: { maxOldGenerationSizeMb: MEMORY_MB },
    })
    const end = (outcome: FormOutcome) => {
      clearTimeout(timer)
      void worker.terminate()
      resolve(outcome)
    }
    const { milliseconds } = job.limits ?? FORM_LIMITS
    const timer = setTimeout(
      () => end(given(job, `the form takes longer than ${milliseconds / 1000} s and was ended`)),
      milliseconds + GRACE_MS,
    )
    worker.once('message', end)
    worker.once('error', error =>
      end(
        given(
          job,
          (error as NodeJS.ErrnoException).code === 'ERR_WORKER_OUT_OF_MEMORY'
            ? 'the form takes too much memory and was ended'
            : error.message,
        ),
      ),
    )
  })

const given = ({ name }: FormJob, message: string): FormOutcome => ({
  fault: { form: name, line: 1, column: 1, message },
})
