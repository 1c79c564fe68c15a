import { mkdtempSync, rmSync } from 'node:fs';
import { rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { Router, type Request, type Response } from 'express';
import multer, { MulterError } from 'multer';
import { z } from 'zod';
import { IdText } from '../../../shared/contracts/primitives.ts';
import { AcceptImport, ImportMapping, WithdrawImport } from '../../../shared/contracts/sales.ts';
import { demandRight } from '../../lib/authorise.ts';
import { actorOf } from '../../lib/http.ts';
import type { Deps } from '../../lib/deps.ts';
import { parseRequest, ProblemError } from '../../lib/problem.ts';
import * as service from './imports.service.ts';

const largestFileBytes = 200 * 1024 * 1024;
const ListQuery = z.object({ categoryId: IdText.optional() });

export function salesRouter({ database }: Deps): Router {
  // The types of multer don't know `defParamCharset` yet.
  const options: multer.Options & { defParamCharset: string } = {
    storage: multer.diskStorage({ destination: (_request, _file, done) => done(null, openUploadFolder()) }),
    defParamCharset: 'utf8',
    limits: { fileSize: largestFileBytes, files: 1, fields: 5, parts: 6 },
  };
  const takeFile = multer(options).single('file');
  const router = Router();
  const idOf = (request: Request) => parseRequest(IdText, request.params.id);

  router.get('/imports', async (request, response) => {
    const { categoryId } = parseRequest(ListQuery, request.query);
    response.json(await service.listImports(database, actorOf(request), categoryId ?? null));
  });

  router.post('/imports', async (request, response) => {
    const actor = actorOf(request);
    // Asked before the bytes are taken in.
    demandRight(actor, 'import-sales', null);
    const file = await receive(takeFile, request, response);
    try {
      const fileName = file.originalname.replaceAll('\u0000', '');
      const detail = await service.receiveFile(database, actor, { path: file.path, fileName });
      response.status(201).json(detail);
    } finally {
      await rm(file.path, { force: true });
    }
  });

  router.get('/imports/:id', async (request, response) => {
    response.json(await service.readImport(database, actorOf(request), idOf(request)));
  });

  router.put('/imports/:id/mapping', async (request, response) => {
    const mapping = parseRequest(ImportMapping, request.body);
    response.json(await service.changeMapping(database, actorOf(request), idOf(request), mapping));
  });

  router.post('/imports/:id/accept', async (request, response) => {
    const body = parseRequest(AcceptImport, request.body);
    response.status(202).json(await service.acceptImport(database, actorOf(request), idOf(request), body));
  });

  router.post('/imports/:id/withdraw', async (request, response) => {
    const body = parseRequest(WithdrawImport, request.body);
    response.status(202).json(await service.withdrawImport(database, actorOf(request), idOf(request), body));
  });

  router.delete('/imports/:id', async (request, response) => {
    await service.discardImport(database, actorOf(request), idOf(request));
    response.status(204).end();
  });

  router.get('/imports/:id/refused.csv', async (request, response) => {
    const { fileName, text } = await service.readRefusedRows(database, actorOf(request), idOf(request));
    response.attachment(fileName).type('text/csv; charset=utf-8').send(text);
  });

  return router;
}

let uploadFolder: string | null = null;

/** A folder of this process alone, gone when it ends: another user of the machine can neither look in nor stand in the way. */
function openUploadFolder(): string {
  if (uploadFolder === null) {
    const folder = mkdtempSync(path.join(tmpdir(), 'fairweek-uploads-'));
    process.once('exit', () => rmSync(folder, { recursive: true, force: true }));
    uploadFolder = folder;
  }
  return uploadFolder;
}

function receive(
  takeFile: ReturnType<multer.Multer['single']>,
  request: Request,
  response: Response,
): Promise<Express.Multer.File> {
  return new Promise((resolve, reject) => {
    takeFile(request, response, (error: unknown) => {
      if (error instanceof MulterError) {
        reject(
          error.code === 'LIMIT_FILE_SIZE'
            ? new ProblemError('file-too-large', 'Files of up to 200 MB are read. Split it by year or by category.')
            : new ProblemError('invalid-request', 'Send one file, in the field “file”.'),
        );
      } else if (error) {
        reject(error instanceof Error ? error : new Error('the upload failed', { cause: error }));
      } else if (request.file) {
        resolve(request.file);
      } else {
        reject(new ProblemError('invalid-request', 'Send one file, in the field “file”.'));
      }
    });
  });
}
