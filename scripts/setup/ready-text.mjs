/**
 * The last words of a start.
 *
 * @param {{ publicUrl: string, port: number, dataFolder: string, smtpUrl?: string }} configuration
 * @param {{ url: string, smtpUrl: string } | null} catcher
 * @param {{ signIns: { role: string, email: string, password: string }[] }} prepared
 */
export function readyText({ publicUrl, dataFolder, smtpUrl }, catcher, { signIns }) {
  const lines = ['', 'Swaypoint is ready', '', `  ${publicUrl}`, ''];
  if (signIns.length > 0) {
    lines.push('  Sign in to the demo lab as');
    const width = (name) => Math.max(...signIns.map((one) => one[name].length));
    for (const { role, email, password } of signIns) {
      const columns = [role.padEnd(width('role')), email.padEnd(width('email')), password];
      lines.push(`    ${columns.join('   ')}`);
    }
    lines.push('');
  }
  lines.push(
    catcher === null
      ? `  Mail goes out through ${withoutPassword(smtpUrl)}`
      : `  Mail stays on this machine; read it at ${catcher.url} (SMTP at ${catcher.smtpUrl})`,
    `  Data are kept in ${dataFolder}`,
    '  Ctrl-C ends it',
  );
  return lines.join('\n');
}

function withoutPassword(address) {
  const url = new URL(address);
  return `${url.protocol}//${url.host}`;
}
