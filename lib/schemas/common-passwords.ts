/** Passwords that appear at the top of every published list of leaked ones (common practice; from memory), 8 characters and more. */
export const commonPasswords: ReadonlySet<string> = new Set(
  `password password1 password12 password123 password1234 passw0rd p@ssw0rd p@ssword 12345678 123456789 1234567890 12345678910
  123123123 11111111 111111111 1111111111 00000000 0000000000 22222222 33333333 44444444 55555555 66666666 77777777 88888888 99999999
  87654321 987654321 9876543210 0123456789 12341234 11223344 1122334455 12121212 13131313 69696969 123321123 147258369 159753456
  qwertyui qwertyuiop qwerty123 qwerty12 qwerty1234 1q2w3e4r 1q2w3e4r5t 1qaz2wsx 1qazxsw2 qazwsxedc zaq12wsx asdfghjk asdfghjkl
  asdf1234 zxcvbnm1 abcd1234 abc12345 abcdefgh abcdefghi aaaaaaaa a1b2c3d4 iloveyou iloveyou1 iloveyou2 sunshine sunshine1 princess
  princess1 football football1 baseball baseball1 basketball superman superman1 spiderman michael1 jennifer jessica1 charlie1 trustno1
  whatever welcome1 welcome123 letmein1 letmein123 changeme changeme123 computer computer1 internet startrek starwars pokemon1 dragon123
  monkey123 master123 shadow123 admin123 admin1234 administrator root1234 test1234 testtest guest123 default1 secret123 mypassword
  corvette mustang1 maverick midnight mercedes samantha victoria elizabeth alexander benjamin nicholas christopher december november
  september februar1 summer123 winter123 spring123 autumn123 liverpool chelsea1 arsenal1 barcelona realmadrid manchester bayern123
  freedom1 forever1 blink182 metallica nirvana1 slipknot rammstein killer123 hello123 hello1234 helloworld q1w2e3r4 q1w2e3r4t5
  zxcvbnm123 asdfasdf qweasdzxc 1234qwer qwer1234 q1w2e3r4t5y6 password! password1! passwort passwort1 passwort123 hallo123 schatzi1
  motdepasse azertyui azertyuiop contrase contraseña 123qweasd 1qaz2wsx3edc laboratory laboratory1 notebook notebook1`.split(
    /\s+/,
  ),
);
