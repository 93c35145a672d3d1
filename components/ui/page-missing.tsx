import { KeyLink } from './key';
import { EmptyState } from './states';

/** Nothing at this address; the same words whether it never was, is gone, or is not this lab's. */
export function PageMissing() {
  return (
    <>
      <h1 className="sr-only">Nothing here</h1>
      <EmptyState
        title="There is nothing at this address"
        action={
          <KeyLink kind="filled" href="/today">
            To today
          </KeyLink>
        }
      >
        <p>The address may be mistyped, or what was here is not in your lab.</p>
      </EmptyState>
    </>
  );
}
