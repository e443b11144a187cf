import { useEffect, useRef, type RefObject } from 'react';

/**
 * Focuses a field that has just opened inside the editor. The editor itself may still take the focus in the next
 * frame (a command that ended with focus() does), so the field asks once more after it, and `ready` stays false until
 * then: a blur before that is not a person leaving.
 */
export function useFieldFocus(field: RefObject<HTMLInputElement | HTMLTextAreaElement | null>): RefObject<boolean> {
  const ready = useRef(false);
  useEffect(() => {
    field.current?.focus();
    field.current?.select();
    const frame = requestAnimationFrame(() => {
      if (field.current && document.activeElement !== field.current) field.current.focus();
      ready.current = true;
    });
    return () => cancelAnimationFrame(frame);
  }, [field]);
  return ready;
}
