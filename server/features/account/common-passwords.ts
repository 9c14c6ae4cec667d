/**
 * Words and runs that passwords are most often made of, written down from general knowledge of published frequency lists, not copied from
 * one. It is no list of breached passwords: those hold hundreds of millions and would have to be asked over the network.
 */
export const commonPasswordParts: readonly string[] = `
password passw0rd passwort motdepasse contrasena senha wachtwoord losenord haslo parola sifre parole kodeord passord salasana
jelszo heslo qwerty qwertz azerty qwertyuiop qwertzuiop azertyuiop asdfghjkl asdfgh asdf zxcvbnm zxcvbn yxcvbnm qazwsx qazwsxedc
wsxedc 1qaz2wsx 1q2w3e4r 1q2w3e4r5t 1q2w3e zaq12wsx q1w2e3r4 qweasdzxc qweasd asdzxc 123456 1234567 12345678 123456789 1234567890
0123456789 0987654321 987654321 87654321 654321 54321 12345 1234 4321 123123 123321 112233 11223344 121212 111111 000000 222222
333333 444444 555555 666666 777777 888888 999999 101010 131313 159753 147258369 147258 258369 789456123 456789 741852963 963852741
246810 13579 abc123 123abc a1b2c3 a1b2c3d4 abcdef abcdefg abcdefgh abcdefghijkl abcd abc xyz aaaaaa iloveyou ilovegod loveyou
lovely lover love hello hallo welcome willkommen bienvenue benvenuto bemvindo letmein trustno1 whatever access login logmein admin
administrator root superuser user guest test tester testing temp temporary changeme change default secret secrets private public
system server service support master mastermind money dollar million dragon monkey tiger lion panther eagle falcon hunter wolf
bear shark snake horse pony kitty kitten cat cats puppy dog dogs doggy bunny rabbit turtle dolphin chicken penguin butterfly
spider lizard elephant panda buffalo cheetah cougar jaguar leopard gorilla bulldog beagle football soccer baseball basketball
hockey tennis golf golfer rugby cricket swimming running skiing snowboard volleyball boxing wrestling racing nascar formula
champion winner runner player gamer gaming sunshine sunflower summer winter spring autumn fall sommer herbst fruhling printemps
hiver automne verano invierno otono january february march april may june july august september october november december januar
februar maerz mai juni juli oktober dezember monday tuesday wednesday thursday friday saturday sunday montag dienstag mittwoch
donnerstag freitag samstag sonntag princess prince queen king angel angels devil demon heaven jesus christ jesuschrist god blessed
faith hope grace church bible peace freedom liberty justice spirit soul superman batman spiderman ironman starwars startrek
pokemon pikachu naruto minecraft fortnite warcraft hogwarts harrypotter gandalf matrix ninja samurai pirate wizard hobbit mickey
mickeymouse donald snoopy garfield tweety barbie hellokitty scooby michael michelle jennifer jessica ashley amanda nicole daniel
daniela andrew joshua matthew robert thomas william charlie jordan taylor anthony brandon justin hannah samantha melissa stephanie
elizabeth victoria alexander alexandra christopher christian nicholas jonathan benjamin patrick richard george david james john
maria marie anna julia laura sarah sara emma sophie martin peter stefan andreas markus klaus hans pierre jean jose juan carlos
antonio manuel francisco giovanni marco mario luca paolo ivan dmitri sergey natasha olga anastasia mohammed ahmed ali fatima
liverpool arsenal chelsea manchester manunited barcelona realmadrid juventus bayern dortmund celtic rangers everton tottenham
newcastle yankees redsox cowboys steelers lakers eagles packers london paris berlin madrid roma vienna wien zurich geneva newyork
america england ireland scotland germany deutschland france italia espana brasil mexico canada australia russia china japan india
turkey texas california florida chicago boston dallas denver houston phoenix seattle computer internet windows microsoft apple
iphone android google facebook twitter instagram youtube linkedin netflix amazon samsung nokia dell lenovo macbook laptop keyboard
monitor printer network wireless router cisco linux ubuntu database oracle mysql postgres java python mercedes porsche ferrari
lamborghini corvette mustang camaro chevrolet toyota honda nissan yamaha kawasaki suzuki harley harleydavidson ducati volkswagen
audi subaru jeep chocolate cookie cookies banana orange cherry strawberry coffee pepper ginger cheese pizza burger sugar honey
candy peanut butter bacon whiskey vodka beer guinness corona budweiser purple yellow green blue black white silver golden gold
rainbow pink red brown diamond crystal emerald ruby pearl sapphire flower rose lily daisy jasmine violet orchid tulip guitar piano
drummer metallica nirvana slipknot eminem rockstar rocknroll beatles elvis madonna music dance dancer singer
correcthorsebatterystaple thisisapassword mypassword yourpassword nopassword passwordpassword newpassword oldpassword
forgetpassword ihatepasswords opensesame abracadabra blink182 ncc1701 bond007 letmeinnow iamtheboss whoami donttellanyone
itsasecret noneofyourbusiness fuckyou fuckoff fuck shit asshole bitch sexy sexsex porn pussy dick cock boobs batterboard plumb
level survey surveyor theodolite building construction concrete formwork contractor engineer architect project site office
baustelle chantier company firma work working business boss manager director sales marketing finance accounting family mother
father mama papa mommy daddy sister brother baby babygirl babyboy friend friends forever always never together sweetheart darling
honeybunny cutie beautiful handsome one two three four five six seven eight nine ten zero first second third last
`
	.trim()
	.split(/\s+/);
