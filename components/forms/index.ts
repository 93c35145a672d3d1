export { ActionProblem } from './action-problem';
export { controlClass, describedBy, Field, type FieldProps } from './field';
export { FollowJob } from './follow-job';
export { FormProblem, type Problem } from './form-problem';
export { Check, FieldGroup, NumberField, type Option, Select, TextArea, TextField } from './inputs';
export { useAction } from './use-action';
export { type JobView, useJob } from './use-job';
