/** What turns the compressed bytes of a block into readings, by geotiff; a file of its own, since only grids need it. */
import {BaseDecoder, getDecoder} from "geotiff";

type Parameters = ConstructorParameters<typeof BaseDecoder>[0];

/** A decoder of ours in place of geotiff's, whose predictors still follow. */
class OwnDecoder extends BaseDecoder {
  readonly decompress: (bytes: Uint8Array) => Uint8Array;
  constructor(parameters: Parameters, decompress: (bytes: Uint8Array) => Uint8Array) {
    super(parameters);
    this.decompress = decompress;
  }
  override decodeBlock(buffer: ArrayBufferLike): ArrayBuffer {
    return ownBuffer(this.decompress(new Uint8Array(buffer)));
  }
}

/** @param decompress in place of geotiff's way for `compression` */
export const decoderFor = async (
  compression: number,
  parameters: Parameters,
  decompress: ((bytes: Uint8Array) => Uint8Array) | undefined,
): Promise<BaseDecoder> =>
  decompress === undefined ? getDecoder(compression, parameters) : new OwnDecoder(parameters, decompress);

/** The same bytes alone in a buffer, which is what geotiff's decoders take. */
export function ownBuffer(bytes: Uint8Array): ArrayBuffer {
  const {buffer, byteOffset, byteLength} = bytes;
  if (byteOffset === 0 && byteLength === buffer.byteLength && buffer instanceof ArrayBuffer) return buffer;
  // Not `slice`: Node's Buffer has one that copies nothing.
  return new Uint8Array(bytes).buffer;
}
