/**
 * State and county parts of API well numbers. One row a state: its number, two-letter code and name; the last of its odd
 * county numbers, which run 001, 003, … in the order of the counties' names; then the odd numbers that are left out
 * (`-41`) and those given besides: counties founded later, cities, and waters of the state (`203`, `700-731`).
 *
 * Source: API Bulletin D12A (1979), "The API Well Number and Standard State and County Numeric Codes Including Offshore
 * Waters", as carried in a public database of area codes that lists it county by county (read 2026); each row's number of
 * codes agrees with that list. Kern County, California has two (029 and 030). The codes are not those of the federal
 * standard (FIPS): states are numbered otherwise, and counties mostly but not always alike (Alaska's are map sheets).
 * The areas of federal waters (states 55 to 61) are left out, and said to be unchecked.
 */
const ROWS = `
01|AL|Alabama|133|203 297
02|AZ|Arizona|27|12
03|AR|Arkansas|149|
04|CA|California|115|30 116 118 120 122 124 126 128 130 201 211 213 215 216 218 220 222 223 224 226 228 230 237 241 245 253 255 259 273 275 279 281 283 287 295 297 305 307-313
05|CO|Colorado|125|14
06|CT|Connecticut|15|201 207 209 211
07|DE|Delaware|5|119 126 205
08|DC|District of Columbia|1|
09|FL|Florida|133|2 38 205 209 211 215 217 221 225 229 231 233 235 237 245 253 257 261 265 271 275 281 285 287 289 291 299 301 303 309 311 313 315 322 323 324 327 329 330 331 336 341 344 346
10|GA|Georgia|321|-41 -203 28 102 329 339 351 427 479 491
11|ID|Idaho|89|
12|IL|Illinois|203|512
13|IN|Indiana|183|513
14|IA|Iowa|197|
15|KS|Kansas|209|
16|KY|Kentucky|239|
17|LA|Louisiana|127|129 700-731
18|ME|Maine|31|205 209 213 215 223 229 231
19|MD|Maryland|47|117 125 247
20|MA|Massachusetts|27|129 135 136 142 147 152 201 205 207 209 219 221 223 225
21|MI|Michigan|165|521 554 556 558
22|MN|Minnesota|173|522
23|MS|Mississippi|163|245 247 259
24|MO|Missouri|229|
25|MT|Montana|113|
26|NE|Nebraska|185|
27|NV|Nevada|33|
28|NH|New Hampshire|19|215
29|NJ|New Jersey|41|118 127 133 139 201 209 225 229
30|NM|New Mexico|61|6 28
31|NY|New York|123|134 140 141 144 247 259 281 285 303 531 560
32|NC|North Carolina|199|30 116 160 219 231 253 255 295 329 333 341
33|ND|North Dakota|105|
34|OH|Ohio|175|534
35|OK|Oklahoma|153|
36|OR|Oregon|71|207 211 215 219 239 241 257
37|PA|Pennsylvania|133|537
38|RI|Rhode Island|9|205 209
39|SC|South Carolina|91|104 213 219 229 243 251
40|SD|South Dakota|137|-1 -133
41|TN|Tennessee|189|
42|TX|Texas|507|600-606 700-715
43|UT|Utah|57|
44|VT|Vermont|27|
45|VA|Virginia|199|-55 -189 110 201 331 351 399 510 515 520 530 540 550 560 570 580 590 595 600 610 620 630 640 650 660 670 678 680 683 685 690 700 710 720 730 735 740 750 760 770 775 780 790 800 810 820 830 840 900-937
46|WA|Washington|77|209 227 231 249 269
47|WV|West Virginia|109|
48|WI|Wisconsin|141|78 548 570
49|WY|Wyoming|47|
50|AK|Alaska|305|4 72 262 366 367 397 601 603 607 609 613 617 619 623 625 629 633 641 645 647 649 653 661 669 671 673 675 679 685 687 689 693 695 697 701 703 709 715 721 723 725 729 733 735 737 739 741 743 745 747 763 769 775 779 781 785 787 789 791 795 797 801 805 807 809 811 813 815 817 825 827 829 831 833 835 839 841 843 847 849 851 853 855 857 859 861 865 877 879 881 883 885 887 889 891 893 895 899 901 905
51|HI|Hawaii|-1|10 15 20 25 35
55|AK|Alaska offshore||
56||Pacific coast offshore||
60||northern Gulf of Mexico||
61||Atlantic coast offshore||
`;

export interface ApiState {
  /** `37`. */
  readonly code: string;
  /** Two-letter code of the state, as on an envelope; empty for waters that are no state's. */
  readonly postal: string;
  readonly name: string;
  /** County numbers in use; null where the table has none (federal waters: their numbers are map sheets). */
  readonly counties: ReadonlySet<number> | null;
}

let parsed: ReadonlyMap<string, ApiState> | null = null;

/** All states of the standard by their two digits. */
export function apiStates(): ReadonlyMap<string, ApiState> {
  parsed ??= new Map(ROWS.trim().split('\n').map((row) => {
    const [code, postal, name, last, others] = row.split('|') as [string, string, string, string, string];
    return [code, { code, postal, name, counties: last === '' ? null : countiesOf(Number(last), others) }];
  }));
  return parsed;
}

function countiesOf(last: number, others: string): ReadonlySet<number> {
  const counties = new Set<number>();
  for (let county = 1; county <= last; county += 2) counties.add(county);
  for (const entry of others.split(' ').filter((each) => each !== '')) {
    const [from, to] = entry.split('-').map(Number) as [number, number | undefined];
    if (entry.startsWith('-')) counties.delete(to!);
    else for (let county = from; county <= (to ?? from); county++) counties.add(county);
  }
  return counties;
}
