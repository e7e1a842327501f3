import express from 'express';
import type { AddressInfo } from 'node:net';

/** The least that the framework can answer. */
const app = express();
app.get('/', (_req, res) => {
  res.json({ hello: 'world' });
});
const server = app.listen(0, '127.0.0.1', () => process.send?.((server.address() as AddressInfo).port));
