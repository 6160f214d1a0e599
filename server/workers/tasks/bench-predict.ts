export { benchPredict } from '#shared/physics/predict/bench-predict'
