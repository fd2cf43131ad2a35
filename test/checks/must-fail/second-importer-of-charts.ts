// src-main/command/wrong-charts.ts | layers | one-importer-of-echarts
export { init } from 'echarts';
