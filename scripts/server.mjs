import { createServer } from "node:http";
import next from "next";

const dev = process.env.NODE_ENV !== "production";
const hostname = process.env.HOST || "127.0.0.1";
const port = Number(process.env.PORT || 3000);

const app = next({ dev, hostname, port });
const handle = app.getRequestHandler();
const server = createServer((request, response) => {
  nameClient(request);
  void handle(request, response);
});
// An upload may take hours on a slow line; the stock limit of five minutes would cut it.
server.requestTimeout = 0;
server.keepAliveTimeout = 65_000;
server.on("error", (error) => {
  console.error(error.code === "EADDRINUSE" ? `Port ${port} on ${hostname} is taken; set PORT to another.` : error.message);
  process.exit(1);
});

process.once("SIGTERM", end);
process.once("disconnect", end);
// The starting process may have gone while this one was still loading.
if (process.connected === false) end();

await app.prepare();
server.listen(port, hostname);

/** Sign-in attempts are limited by client: only a proxy on this machine is believed about who that is. */
function nameClient({ headers, socket }) {
  const local = /^(::ffff:)?127\.|^::1$/.test(socket.remoteAddress ?? "");
  if (!local || !headers["x-forwarded-for"]) headers["x-forwarded-for"] = socket.remoteAddress;
}

function end() {
  server.closeAllConnections();
  server.close(() => process.exit(0));
}
