// The width a picture has to draw in, followed as the page changes, so that lettering keeps its true size.
import { type RefObject } from 'preact';
import { useEffect, useRef, useState } from 'preact/hooks';

export function useWidth<T extends HTMLElement>(first = 0): [RefObject<T | null>, number] {
  const box = useRef<T>(null);
  const [width, setWidth] = useState(first);
  useEffect(() => {
    const element = box.current;
    if (!element) return undefined;
    const read = () => setWidth(Math.floor(element.getBoundingClientRect().width));
    const observer = new ResizeObserver(read);
    observer.observe(element);
    read();
    return () => observer.disconnect();
  }, []);
  return [box, width];
}
