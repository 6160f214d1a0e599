import { DomainError, brokenConstraint } from '../errors'

const messages: Record<string, { path: string, message: string }> = {
  spacecraft_name_unique: { path: 'name', message: 'Another spacecraft has this name: choose another.' },
  spacecraft_catalogue_number_unique: { path: 'catalogueNumber', message: 'Another spacecraft has this catalogue number.' },
  links_name_unique: { path: 'name', message: 'This spacecraft has a link of this name: choose another.' },
  stations_name_unique: { path: 'name', message: 'Another station has this name: choose another.' },
  antennas_name_unique: { path: 'name', message: 'This station has an antenna of this name: choose another.' },
  radios_name_unique: { path: 'name', message: 'This antenna has a radio of this name: choose another.' },
}

/** Runs a transaction; what PostgreSQL's unique rules refuse is told as a conflict at the field. */
export async function refuseDuplicates<T>(act: () => Promise<T>): Promise<T> {
  try {
    return await act()
  }
  catch (error) {
    const field = messages[brokenConstraint(error)?.name ?? '']
    if (field) throw new DomainError('conflict', field.message, [field])
    throw error
  }
}
