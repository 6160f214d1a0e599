/** Latitude and longitude with their hemispheres: 69.304° N, 16.118° E. */
export function positionText({ latitudeDeg, longitudeDeg }: { latitudeDeg: number, longitudeDeg: number }): string {
  return `${Math.abs(latitudeDeg).toFixed(3)}° ${latitudeDeg < 0 ? 'S' : 'N'}, ${Math.abs(longitudeDeg).toFixed(3)}° ${longitudeDeg < 0 ? 'W' : 'E'}`
}
