/** One call as the writer of a log meant it. Times are the region's wall clock. */
export interface MeantCall {
  readonly at: string;
  readonly name: string | null;
  readonly phone: string | null;
  /** House number and street as in the log, or null. */
  readonly place: string | null;
  readonly unitNo?: string;
  readonly units: string;
  readonly medicine?: true;
  readonly dangers?: readonly string[];
  readonly language?: string;
  /** Lines of the file that are this same household. */
  readonly lines: readonly number[];
  readonly out?: string;
  readonly back?: string;
}

export interface HandLog {
  readonly name: string;
  readonly text: string;
  readonly windows1252?: true;
  readonly calls: readonly MeantCall[];
  /** Lines that a person has to look at, and a word of the reason. */
  readonly aside: Readonly<Record<number, RegExp>>;
  /** Lines that hold no call. */
  readonly empty: readonly number[];
}

const F = 'fridge-freezer';
const U = 'upright-freezer';
const C = 'chest-freezer';

/**
 * Logs written by hand in the way of twelve different services, for the night from 30 November to
 * 1 December 2026 (power out from 18:40). They share nothing with the generator.
 */
export const HAND_LOGS: readonly HandLog[] = [
  {
    name: 'an old terminal with capital letters and a report around the calls',
    text: `"TIDEWATER NIGHT DESK - MESSAGE LOG"
"ACCT 4471","PRINTED 12/01/2026 07:10"

MSG#,DATE,TIME,CALLER,CALL-BACK #,SVC ADDR,APPL,MSG,OP
001,11/30,9:05P,"ASHGROVE, WREN",(252) 555-0101,"14 ELDER ST, PORT NESS",REF,"NOT COOLING SINCE PWR CAME BACK. NO SMOKE, NO BURNING SMELL",JB
002,11/30,9:17P,"O'QUILL, DARIA",252-555-0102,"230 HERON POINT RD APT 4B, PORT NESS",REF/FRZ,"OUT SINCE 7P BACK 845P. INSULIN IN DOOR",JB
003,11/30,11:48P,"MARL, TOBY",555-0103,"9 MILL RUN LN, LOWER NESS","FRZ, CHEST","FULL OF VENISON",KM
MSG#,DATE,TIME,CALLER,CALL-BACK #,SVC ADDR,APPL,MSG,OP
004,12/1,12:06A,"ASHGROVE, WREN",252 555 0101,"14 ELDER STREET, PORT NESS",REF,"CALLED AGAIN. STILL WARM",KM
005,12/1,1:32A,HANG UP,,,,,KM
006,12/1,2:15A,"PELL, ODESSA",252.555.0104,"31 N CAPE LOOP RD, PORT NESS","REF + DEEP FRZ","SMELLS HOT AT OUTLET, TOLD HER TO UNPLUG",KM
,,,,,,,,
PAGE 1 OF 1,,,,,,,,
TOTAL CALLS: 6,,,,,,,,
*** END OF LOG ***`,
    calls: [
      {
        at: '2026-11-30 21:05',
        name: 'Wren Ashgrove',
        phone: '+12525550101',
        place: '14 Elder St',
        units: F,
        lines: [5, 9],
      },
      {
        at: '2026-11-30 21:17',
        name: "Daria O'Quill",
        phone: '+12525550102',
        place: '230 Heron Point Rd',
        unitNo: '4B',
        units: F,
        medicine: true,
        lines: [6],
        out: '2026-11-30 19:00',
        back: '2026-11-30 20:45',
      },
      {
        at: '2026-11-30 23:48',
        name: 'Toby Marl',
        phone: '+12525550103',
        place: '9 Mill Run Ln',
        units: C,
        lines: [7],
      },
      {
        at: '2026-12-01 02:15',
        name: 'Odessa Pell',
        phone: '+12525550104',
        place: '31 N Cape Loop Rd',
        units: `${F} + ${C}`,
        dangers: ['burning-smell'],
        lines: [11],
      },
    ],
    aside: { 10: /no phone number and no address/ },
    empty: [8, 12, 13, 14, 15],
  },
  {
    name: 'a European-minded form: semicolons, 24 hours, house number in a column of its own',
    text: `Nr;Uhr;Name;First;Tel.;House #;Street;Apt;Town;Fridge/Frzr;Problem;Out since;Pwr back
1;19.55;Brandreth;Ines;2525550110;88;Quay Row;;Port Ness;fridge;warm inside;18.40;still out
2;21.10;de la Torre;Iván;+1 252 555 0111;88;Quay Row;2;Port Ness;fridge;light on, motor silent;18.40;20.30
3;23.59;Fenwick;Ada;252-5550112;88;Quay Row;3;Port Ness;upright freezer;"thawing; ice cream soft";18.40;20.30
4;00.20;Fenwick;Ada;252-5550112;88;Quay Row;3;Port Ness;upright freezer;asks when someone comes;18.40;20.30
5;04.05;Obi;Chike;1-252-555-0113;7;Gull Loop;;Lower Ness;fridge and chest freezer in garage;no insulin, no meds;1840;2030
`,
    calls: [
      {
        at: '2026-11-30 19:55',
        name: 'Ines Brandreth',
        phone: '+12525550110',
        place: '88 Quay Row',
        units: F,
        lines: [2],
        out: '2026-11-30 18:40',
      },
      {
        at: '2026-11-30 21:10',
        name: 'Iván de la Torre',
        phone: '+12525550111',
        place: '88 Quay Row',
        unitNo: '2',
        units: F,
        lines: [3],
        out: '2026-11-30 18:40',
        back: '2026-11-30 20:30',
      },
      {
        at: '2026-11-30 23:59',
        name: 'Ada Fenwick',
        phone: '+12525550112',
        place: '88 Quay Row',
        unitNo: '3',
        units: U,
        lines: [4, 5],
        out: '2026-11-30 18:40',
        back: '2026-11-30 20:30',
      },
      {
        at: '2026-12-01 04:05',
        name: 'Chike Obi',
        phone: '+12525550113',
        place: '7 Gull Loop',
        units: `${F} + ${C}`,
        lines: [6],
        out: '2026-11-30 18:40',
        back: '2026-11-30 20:30',
      },
    ],
    aside: {},
    empty: [],
  },
  {
    name: 'a web export: ISO times with offsets, camel case, line breaks in quotes, newest first',
    text: `callId,receivedAt,callerName,callerPhone,altPhone,addressLine1,addressLine2,city,zip,messageText,operator
a-19,2026-12-01T03:40:00-05:00,Mina Sorrel,+12525550123,,5 Strand Walk,Lot 12,Port Ness,27999,"Fridge dead.
Baby formula and breast milk inside.
Please hurry",sal
a-18,2026-12-01T01:02:00-05:00,Gus Lamb,+12525550122,+12525550129,77 Harbor Hill Dr,,Port Ness,27999,"Walk-in cooler down at the diner, 46 F and rising",sal
a-17,2026-11-30T23:15:00-05:00,Mina Sorrel,+12525550121,,5 Strand Walk,Lot 12,Port Ness,27999,"fridge, says ""nothing works""",sal
a-16,2026-11-30T22:01:00-05:00,Rex Tarn,+1252555012,,,,Port Ness,27999,freezer,sal
`,
    calls: [
      {
        at: '2026-11-30 23:15',
        name: 'Mina Sorrel',
        phone: '+12525550121',
        place: '5 Strand Walk',
        unitNo: '12',
        units: F,
        medicine: true,
        lines: [6, 2],
      },
      {
        at: '2026-12-01 01:02',
        name: 'Gus Lamb',
        phone: '+12525550122',
        place: '77 Harbor Hill Dr',
        units: 'walk-in',
        lines: [5],
      },
    ],
    aside: { 7: /phone number cannot be read/ },
    empty: [],
  },
  {
    name: 'no titles at all, tabs, times without a day and without a or p',
    text: `9:40	Lena Ashby	252-555-0130	16 Cove View Ct	fridge	no light, breaker ok
10:25	Pim Oakes	252-555-0131	102 Cove View Ct	chest freezer	out since 7
11:50	Nell Dray	252-555-0132	44 Sandy Point Farm Rd	freezer	outlet sparked
12:35	Cy Rook	252-555-0133	3 Elder St	fridge	spanish speaking
1:10	Lena Ashby	252-555-0130	16 Cove View Ct	fridge	again
3:05	Dot Vane	252-555-0134	18 Cove View Ct	fridge	has meds in fridge
`,
    calls: [
      {
        at: '2026-11-30 21:40',
        name: 'Lena Ashby',
        phone: '+12525550130',
        place: '16 Cove View Ct',
        units: F,
        lines: [1, 5],
      },
      {
        at: '2026-11-30 22:25',
        name: 'Pim Oakes',
        phone: '+12525550131',
        place: '102 Cove View Ct',
        units: C,
        lines: [2],
        out: '2026-11-30 19:00',
      },
      {
        at: '2026-11-30 23:50',
        name: 'Nell Dray',
        phone: '+12525550132',
        place: '44 Sandy Point Farm Rd',
        units: U,
        dangers: ['sparks'],
        lines: [3],
      },
      {
        at: '2026-12-01 00:35',
        name: 'Cy Rook',
        phone: '+12525550133',
        place: '3 Elder St',
        units: F,
        language: 'es',
        lines: [4],
      },
      {
        at: '2026-12-01 03:05',
        name: 'Dot Vane',
        phone: '+12525550134',
        place: '18 Cove View Ct',
        units: F,
        medicine: true,
        lines: [6],
      },
    ],
    aside: {},
    empty: [],
  },
  {
    name: 'Spanish titles in Windows-1252',
    windows1252: true,
    text: `Fecha,Hora,Nombre,Teléfono,Dirección,Ciudad,Aparato,Mensaje
30/11/2026,22:10,Íñigo Peñalba,(252) 555-0140,8 Calle Faro,Port Ness,nevera,"sin luz desde las 7, no enfría"
30/11/2026,23:30,Zoë D’Arcy,252 555 0141,19 Lantern Ave,Port Ness,congelador,hay humo
01/12/2026,00:45,Núria Solé,252.555.0142,21 Lantern Ave,Port Ness,nevera y congelador horizontal,tiene insulina
01/12/2026,01:15,Núria Solé,252.555.0142,21 Lantern Ave,Port Ness,nevera,ya no tiene insulina fría
`,
    calls: [
      {
        at: '2026-11-30 22:10',
        name: 'Íñigo Peñalba',
        phone: '+12525550140',
        place: '8 Calle Faro',
        units: F,
        language: 'es',
        lines: [2],
        out: '2026-11-30 19:00',
      },
      {
        at: '2026-11-30 23:30',
        name: 'Zoë D’Arcy',
        phone: '+12525550141',
        place: '19 Lantern Ave',
        units: U,
        dangers: ['smoke'],
        lines: [3],
      },
      {
        at: '2026-12-01 00:45',
        name: 'Núria Solé',
        phone: '+12525550142',
        place: '21 Lantern Ave',
        units: `${F} + ${C}`,
        medicine: true,
        language: 'es',
        lines: [4, 5],
      },
    ],
    aside: {},
    empty: [],
  },
  {
    name: 'one pasted column after another, with dates on lines of their own and stray quotes',
    text: `Time|Who|Number|Where|What|Taken
--- Monday 11/30/2026 ---
2015|Bea Thorne|252-555-0150|6 Rope Walk, Port Ness|18" mini fridge in "granny" flat|RT
2340|Bea Thorne (landline)|252-555-0151|6 Rope Walk, Port Ness|mini fridge still warm|RT
--- Tuesday 12/01/2026 ---
0010|Sol Keane|252-555-0152|400 Hwy 12 N, Lower Ness|side by side, water on floor|RT
0010|Sol Keane|252-555-0152|400 Hwy 12 N, Lower Ness|side by side, water on floor|RT
0145|J Wick|unknown|somewhere on Hwy 12|freezer|RT
0200|test call|252-555-0100|||RT
*** STORM UPDATE: utility says 6am ***
`,
    calls: [
      {
        at: '2026-11-30 20:15',
        name: 'Bea Thorne',
        phone: '+12525550150',
        place: '6 Rope Walk',
        units: 'refrigerator',
        lines: [3, 4],
      },
      {
        at: '2026-12-01 00:10',
        name: 'Sol Keane',
        phone: '+12525550152',
        place: '400 Hwy 12 N',
        units: F,
        dangers: ['water'],
        lines: [6, 7],
      },
      {
        at: '2026-12-01 01:45',
        name: 'J Wick',
        phone: null,
        place: 'somewhere on Hwy 12',
        units: U,
        lines: [8],
      },
    ],
    aside: { 9: /test call/, 10: /no phone number and no address/ },
    empty: [2, 5],
  },
  {
    name: 'ragged rows: unquoted commas, names with commas, messages broken over lines',
    text: `Call Time,Caller,Contact No,Location,City,Unit,Remarks,Lang,Agent
11/30/26 8:15 PM,Orla Finch,(252)555-0160,12 Beacon Hill Rd,Port Ness,Fridge,warm, milk smells, please call,EN,d
11/30/26 8:40 PM,Quist, Per,(252)555-0161,90 Beacon Hill Rd,Port Ness,Freezer,full of fish,EN,d
11/30/26 9:20 PM,Ravi Sund,(252)555-0162,13 Beacon Hill Rd #2,Port Ness,Fridge,compressor clicks
and there is insulin inside,EN,d
11/30/26 9:45 PM,Tess Vole,(252)555-0163,14 Beacon Hill Rd,Port Ness,Fridge
11/30/26 11:58 PM,Uma Wren,(252)555-0164,15 Beacon Hill Rd,Port Ness,Washer,leaks,EN,d
12/1/26 12:12 AM,Vic Yew,(252)555-0165 x12,16 Beacon Hill Rd,Port Ness,Stand up freezer,"line down in the yard, no smoke",ES,d
`,
    calls: [
      {
        at: '2026-11-30 20:15',
        name: 'Orla Finch',
        phone: '+12525550160',
        place: '12 Beacon Hill Rd',
        units: F,
        language: 'en',
        lines: [2],
      },
      {
        at: '2026-11-30 20:40',
        name: 'Per Quist',
        phone: '+12525550161',
        place: '90 Beacon Hill Rd',
        units: U,
        language: 'en',
        lines: [3],
      },
      {
        at: '2026-11-30 21:20',
        name: 'Ravi Sund',
        phone: '+12525550162',
        place: '13 Beacon Hill Rd',
        unitNo: '2',
        units: F,
        medicine: true,
        language: 'en',
        lines: [4],
      },
      {
        at: '2026-11-30 21:45',
        name: 'Tess Vole',
        phone: '+12525550163',
        place: '14 Beacon Hill Rd',
        units: F,
        lines: [6],
      },
      {
        at: '2026-12-01 00:12',
        name: 'Vic Yew',
        phone: '+12525550165',
        place: '16 Beacon Hill Rd',
        units: U,
        dangers: ['downed-line'],
        language: 'es',
        lines: [8],
      },
    ],
    aside: { 7: /washer/ },
    empty: [],
  },
  {
    name: 'a spreadsheet: serial dates, numbers as floats, CLI beside the call-back, addresses in three cells',
    text: `sep=;
CLI;Call-back #;Caller;Addr1;Addr2;Addr3;Appl;Insulin?;Msg;Msg taken
2525550170.0;;Hal Brook;1 Tern Ct;;Port Ness 27999;Fridge;N;no cooling;46356.8125
2525550171.0;2525550172.0;Ivy Croft;2 Tern Ct;Apt 7;Port Ness 27999;Freezer - chest;Y;;46356.90625
BLOCKED;2.525550173E+09;Jo Dell;3 Tern Ct;;Port Ness 27999;both;;fridge and freezer section;46357.0625
2525550174.0;;;;;;;;;46357.125
`,
    calls: [
      {
        at: '2026-11-30 19:30',
        name: 'Hal Brook',
        phone: '+12525550170',
        place: '1 Tern Ct',
        units: F,
        lines: [3],
      },
      {
        at: '2026-11-30 21:45',
        name: 'Ivy Croft',
        phone: '+12525550172',
        place: '2 Tern Ct',
        unitNo: '7',
        units: C,
        medicine: true,
        lines: [4],
      },
      {
        at: '2026-12-01 01:30',
        name: 'Jo Dell',
        phone: '+12525550173',
        place: '3 Tern Ct',
        units: F,
        lines: [5],
      },
      {
        at: '2026-12-01 03:00',
        name: null,
        phone: '+12525550174',
        place: null,
        units: '',
        lines: [6],
      },
    ],
    aside: {},
    empty: [],
  },
  {
    name: 'ditto marks, a date only where it changes, the message holds everything else',
    text: `date,time,name,phone,city,message
11/30/2026,10:02 pm,Kit Lowe,252-555-0180,Port Ness,"fridge at 21 Anchor Way apt 3, power out since 9:15p, back on at 10"
,10:30 pm,Kit Lowe,",same",",",forgot to say: wife has insulin in the fridge
,11:59 pm,Moss Hale,252-555-0181,Port Ness,chest freezer 40 Anchor Way. no meds or insulin
12/01/2026,12:20 am,Nan Orr,252-555-0182,"""",cancel - freezer running again
,12:41 am,Ora Pike,call after 6: 252-555-0183,Lower Ness,45 Anchor Way deep freeze and the fridge too
`,
    calls: [
      {
        at: '2026-11-30 22:02',
        name: 'Kit Lowe',
        phone: '+12525550180',
        place: '21 Anchor Way',
        unitNo: '3',
        units: F,
        lines: [2],
        out: '2026-11-30 21:15',
        back: '2026-11-30 22:00',
      },
      {
        at: '2026-11-30 23:59',
        name: 'Moss Hale',
        phone: '+12525550181',
        place: '40 Anchor Way',
        units: C,
        lines: [4],
      },
      {
        at: '2026-12-01 00:20',
        name: 'Nan Orr',
        phone: '+12525550182',
        place: null,
        units: U,
        lines: [5],
      },
      {
        at: '2026-12-01 00:41',
        name: 'Ora Pike',
        phone: '+12525550183',
        place: '45 Anchor Way',
        units: `${C} + ${F}`,
        lines: [6],
      },
    ],
    aside: { 3: /phone number cannot be read/ },
    empty: [],
  },
  {
    name: 'a shift that keeps the evening’s date after midnight',
    text: `Shift date,Rec'd,Customer,Ph #,Service address,Equip,Notes
11/30/26,10:30p,Ida Stone,252-555-0190,5 Larch Ln,fridge,clicking
11/30/26,11:15p,Jem Stone,252-555-0191,7 Larch Ln,fridge,"H 252-555-0191, W 252-555-0192"
11/30/26,12:20a,Kay Frost,252-555-0193,9 Larch Ln,freezer,thawed 3 hrs
11/30/26,2:40a,Len Frost,252-555-0194,11 Larch Ln,freezer,"neighbor 252-555-0193 is out too"
11/30/26,5:05a,Mae Holt,252-555-0195,13 Larch Ln,vaccine fridge,clinic
`,
    calls: [
      {
        at: '2026-11-30 22:30',
        name: 'Ida Stone',
        phone: '+12525550190',
        place: '5 Larch Ln',
        units: F,
        lines: [2],
      },
      {
        at: '2026-11-30 23:15',
        name: 'Jem Stone',
        phone: '+12525550191',
        place: '7 Larch Ln',
        units: F,
        lines: [3],
      },
      {
        at: '2026-12-01 00:20',
        name: 'Kay Frost',
        phone: '+12525550193',
        place: '9 Larch Ln',
        units: U,
        lines: [4],
      },
      {
        at: '2026-12-01 02:40',
        name: 'Len Frost',
        phone: '+12525550194',
        place: '11 Larch Ln',
        units: U,
        lines: [5],
      },
      {
        at: '2026-12-01 05:05',
        name: 'Mae Holt',
        phone: '+12525550195',
        place: '13 Larch Ln',
        units: 'medicine-fridge',
        medicine: true,
        lines: [6],
      },
    ],
    aside: {},
    empty: [],
  },
  {
    name: 'a report dated the morning after, with codes for appliances',
    text: `Harborview Answering Svc   Client: Cold Units   Date: 12/01/2026
,,,,,,,
Line,Caller ID,Caller,Phone given,Location of unit,Type,Message text,Time (24h)
1,BLOCKED,Ms. A. Ferro,2525550111,"1402 Bayshore Dr, Apt 3, Port Ness",FRZ-CHEST,"chest frzr warm; pwr back 1900, unit dead",1912
2,2525550112,"Ferro, Al",,"1402 Bayshore Dr #3, Port Ness",FRIDGE,"same family, fridge too",2005
3,2525550113,Garza,(252) 555-0113,,RF,"will text addr. baby's milk",2340
4,2525550115,?,?,?,?,static on line,0130
5,2525550116,Dr Voss clinic,2525550116,"5 Quay Row Ste 200, Port Ness",VAX FRIDGE,12C inside,0245
Page 1 of 1,,,,,,,
Total: 5 calls,,,,,,,
`,
    calls: [
      {
        at: '2026-11-30 19:12',
        name: 'Ms. A. Ferro',
        phone: '+12525550111',
        place: '1402 Bayshore Dr',
        unitNo: '3',
        units: `${C} + ${F}`,
        lines: [4, 5],
        back: '2026-11-30 19:00',
      },
      {
        at: '2026-11-30 23:40',
        name: 'Garza',
        phone: '+12525550113',
        place: null,
        units: F,
        medicine: true,
        lines: [6],
      },
      {
        at: '2026-12-01 02:45',
        name: 'Dr Voss clinic',
        phone: '+12525550116',
        place: '5 Quay Row',
        unitNo: '200',
        units: 'medicine-fridge',
        medicine: true,
        lines: [8],
      },
    ],
    aside: { 7: /static on line/ },
    empty: [9, 10],
  },
  {
    name: 'a help desk: everything in the message, a subject beside it',
    text: `"Time";"Operator";"Subject";"Caller Phone";"Caller Name";"Message"
"19:55";"Kim";"Refrigerator not working";"252 555 0150";"Lia Moor";"Lives at 14 Elder St, Apt 2, Port Ness. Fridge quit after storm. Spoke Spanish."
"20:10";"Kim";"Freezer";"2525550151";"Abe Nix";"Address: 15 Elder Street Port Ness. Chest freezer w/ venison; also needs insulin kept cold"
"20:20";"Kim";"Fridge & freezer";"252-555-0152 ext 9";"";"16 Elder st. no insulin or breast milk. sparks from outlet! out 7:15p - 8pm"
"20:31";"Kim";"Fridge";"(252) 555 0150";"Lia Moor";"same caller as 19:55, wants eta"
"00:01";"Lou";"Billing question";"252-555-0153";"Ann Poe";"wants invoice"
"00:15";"Lou";"Walk-in down";"252-555-0154 / 0155";"Harbor Diner";"Harbor Diner, 200 Main St, walk in cooler at 48 and rising, 3000 lbs seafood"
`,
    calls: [
      {
        at: '2026-11-30 19:55',
        name: 'Lia Moor',
        phone: '+12525550150',
        place: '14 Elder St',
        unitNo: '2',
        units: F,
        language: 'es',
        lines: [2, 5],
      },
      {
        at: '2026-11-30 20:10',
        name: 'Abe Nix',
        phone: '+12525550151',
        place: '15 Elder St',
        units: C,
        medicine: true,
        lines: [3],
      },
      {
        at: '2026-11-30 20:20',
        name: null,
        phone: '+12525550152',
        place: '16 Elder St',
        units: `${F} + ${U}`,
        dangers: ['sparks'],
        lines: [4],
        out: '2026-11-30 19:15',
        back: '2026-11-30 20:00',
      },
      {
        at: '2026-12-01 00:15',
        name: 'Harbor Diner',
        phone: '+12525550154',
        place: '200 Main St',
        units: 'walk-in',
        lines: [7],
      },
    ],
    aside: { 6: /billing/ },
    empty: [],
  },
];
