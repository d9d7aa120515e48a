/** Hands a file that the page made to the browser, which saves it. */
export function saveFile(name: string, content: Blob): void {
	const address = URL.createObjectURL(content);
	const link = document.createElement('a');
	link.href = address;
	link.download = name;
	link.click();
	// The save has begun with the click; the memory is given back after it.
	setTimeout(() => URL.revokeObjectURL(address), 60_000);
}
