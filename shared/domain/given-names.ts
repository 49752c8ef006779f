/**
 * Common given names of many countries, lower case, written down from general knowledge. Names that
 * are also everyday words of a hospital or a calendar (april, may, grace, mark, rose, ward, will …) are
 * left out: they would refuse clean text.
 */
export const givenNames: ReadonlySet<string> = new Set(
  `aaron abdul abdullah abigail adam adrian agnes ahmed aisha alan albert alejandro alessandro alex alexander
  alexandra alfred ali alice alicia alison allison amanda amber amelia amina amir amit amy ana andrea andreas andrew
  angela anita ann anna anne annette anthony antonio arjun arthur ayesha barbara beatrice ben benjamin bernard beth
  bethany betty beverly brenda brian bridget bruno camille carl carla carlos carmen carol caroline carolyn catherine
  cecilia charles charlotte chen cheryl chloe christian christina christine christopher claire clara claudia colin
  connor craig cynthia daniel daniela darren david deborah deepak denise dennis derek diana diego dmitri donald donna
  dorothy douglas duncan dylan edith eduardo edward elaine eleanor elena eleni elizabeth ella ellen emily emma
  emmanuel eric erik esther ethan eva evelyn fatima fernando fiona florence frances francesca francesco francis
  frank frederick gareth gary gemma geoffrey george gerald gillian giorgio giovanni giulia gloria gordon graham
  gregory guillermo hamza hannah hans harold harriet harry hassan heather heidi helen helga henry hiroshi howard
  hugo ian ibrahim ines ingrid irene isaac isabel isabella ivan jacob jacqueline jake james jamie jan jane janet
  janice jason javier jean jeffrey jennifer jeremy jessica jill joan joanna joanne joel johan johanna johannes john
  jonathan jorge jose joseph joshua joyce juan judith julia julian julie jürgen karen karim karin karl katarzyna kate
  katherine kathleen kathryn katie keith kelly kenneth kenji kevin khadija kimberly krzysztof kumar larry lars laura
  lauren lawrence leah leila leon leonard leonardo leticia liam linda lisa lorenzo louis louise lucas lucia lucy luis
  luka lukas lydia magdalena malcolm manuel marco marcus margaret maria mariam marie marilyn mario marion marjorie
  marta martha martin martina mary mateo matthew maureen megan mehmet melanie melissa michael michelle miguel mikhail
  mohamed mohammad mohammed monica muhammad mustafa nadia nancy naomi natalia natalie natasha nathan neil nicholas
  nicola nicole nigel nikolai nina noah noor olga oliver olivia omar oscar pablo pamela patricia patrick paul paula
  pauline pedro peter philip pierre priya rachel rafael rahul raj rajesh ralph ravi raymond rebecca ricardo richard
  robert roberto robin roger roland ronald rosemary russell ruth ryan sabrina samantha samira samuel sandra sanjay
  sara sarah sebastian sergei shannon sharon sheila shirley silvia simon sofia sophia sophie stefan stella stephanie
  stephen steven stuart sunita susan suzanne svetlana sylvia tamara tatiana teresa theresa thomas timothy tomasz
  tracy valentina valerie vanessa vera veronica victor victoria vikram vincent vladimir walter wayne wendy wilhelm
  william xavier yasmin yusuf yuki yvonne zainab zoe zofia`.split(/\s+/),
);
