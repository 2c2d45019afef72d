// Holds every answer against the API's own description: the status, the media type and the body that it promises.
import { Ajv2020 } from 'ajv/dist/2020.js';

export interface Described {
  readonly paths: Readonly<Record<string, Readonly<Record<string, { readonly responses?: Readonly<Record<string, { readonly content?: Readonly<Record<string, unknown>> }>> }>>>>;
}

const METHODS = ['get', 'put', 'post', 'delete'] as const;

/** A part of a path in a JSON pointer (RFC 6901). */
const pointer = (text: string): string => encodeURIComponent(text.replaceAll('~', '~0').replaceAll('/', '~1'));

export class ApiRecorder {
  /** `POST /api/v1/assess 200` and so on. */
  readonly seen = new Set<string>();
  readonly wrong: string[] = [];
  readonly #document: Described;
  readonly #ajv = new Ajv2020({ strict: false, validateFormats: false, allErrors: true });

  constructor(document: Described) {
    this.#document = document;
    this.#ajv.addSchema(document, 'api');
  }

  /** Everything that is promised. */
  promised(): string[] {
    return Object.entries(this.#document.paths).flatMap(([path, item]) => METHODS.flatMap((method) => Object.keys(item[method]?.responses ?? {}).map((status) => `${method.toUpperCase()} ${path} ${status}`)));
  }

  /** Takes down what was answered, and what of it was not promised. */
  async took(method: string, path: string, response: Response): Promise<Response> {
    const template = Object.keys(this.#document.paths).find((known) => new RegExp(`^${known.replaceAll('.', '\\.').replaceAll(/\{\w+\}/g, '[^/]*')}$`).test(new URL(path, 'http://x').pathname));
    const responses = template === undefined ? undefined : this.#document.paths[template]?.[method.toLowerCase()]?.responses;
    const named = `${method} ${template ?? path} ${response.status}`;
    const promise = responses?.[String(response.status)];
    if (template === undefined || promise === undefined) {
      this.wrong.push(`${named} is not described`);
      return response;
    }
    this.seen.add(named);
    const type = (response.headers.get('content-type') ?? '').split(';')[0] ?? '';
    const content = promise.content ?? {};
    if (Object.keys(content).length === 0) {
      if ((await response.clone().text()) !== '') this.wrong.push(`${named} has a body and none is described`);
    } else if (!(type in content)) this.wrong.push(`${named} is ${type}, described is ${Object.keys(content).join(', ')}`);
    else if (type.endsWith('json')) {
      const isRight = this.#ajv.compile({ $ref: `api#/paths/${pointer(template)}/${method.toLowerCase()}/responses/${response.status}/content/${pointer(type)}/schema` });
      const body: unknown = await response.clone().json();
      if (isRight(body) !== true) this.wrong.push(`${named}: ${this.#ajv.errorsText(isRight.errors)}`);
    }
    return response;
  }

  /** Whether what a webhook was sent is what is described. */
  sends(body: unknown): boolean {
    return this.#ajv.compile({ $ref: `api#/webhooks/message/post/requestBody/content/${pointer('application/json')}/schema` })(body) === true;
  }

  /** Whether a request is one that is described. */
  takes(method: string, path: string, body: unknown): boolean {
    return this.#ajv.compile({ $ref: `api#/paths/${pointer(path)}/${method.toLowerCase()}/requestBody/content/${pointer('application/json')}/schema` })(body) === true;
  }
}
