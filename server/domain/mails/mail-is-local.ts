/** Without a mail server of the operator's the product's own, on loopback, takes the mail and keeps it for reading. */
export const mailIsLocal = (): boolean => !process.env.SMTP_URL
