export { GrowthChart, type GrowthChartProps } from './growth-chart';
export { JoinedChart, type JoinedChartProps } from './joined-chart';
export { JoinedPlate } from './joined-plate';
export type { Observation } from './layers';
export { RecordChart, type RecordChartProps } from './record-chart';
