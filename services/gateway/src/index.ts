export { type GatewayOptions, type RunningGateway, startGateway } from "./start-gateway.js";
