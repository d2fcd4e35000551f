/**
 * Passwords that guessers try first, the most common first: what is compiled in the Debian package `john-data`
 * (`password.lst` of 2011, by Solar Designer, Openwall; "assumed to be in the public domain"). Kept here: lower-case
 * letters and digits of those with at least four of them, each once.
 */
export const COMMON_PASSWORDS: readonly string[] = `
123456 12345 password password1 123456789 12345678 1234567890 abc123 computer tigger 1234 qwerty money carmen
mickey secret summer internet a1b2c3 service canada hello ranger shadow baseball donald harley hockey letmein
maggie mike mustang snoopy buster dragon jordan michael michelle mindy patrick 123abc andrew bear calvin changeme
diamond fuckme fuckyou matthew miller tiger trustno1 alex apple avalon brandy chelsea coffee falcon freedom
gandalf green helpme linda magic merlin newyork soccer thomas wizard asdfgh bandit batman boris butthead dorothy
eeyore fishing football george happy iloveyou jennifer jonathan love marina master missy monday monkey natasha
ncc1701 pamela pepper piglet poohbear pookie rabbit rachel rocket rose smile sparky spring steven success sunshine
victoria whatever zapata 8675309 amanda andy angel august barney biteme boomer brian casey cowboy delta doctor
fisher island john joshua karen marley orange please rascal richard sarah scooter shalom silver skippy stanley
taylor welcome zephyr 111111 aaaaaa access albert alexander andrea anna anthony asdfjkl ashley basketball beavis
black booboo bradley brandon buddy caitlin camaro charlie chicken chris cindy cricket dakota dallas daniel david
debbie dolphin elephant emily friend fucker ginger goodluck hammer heather iceman jason jessica jesus joseph
jupiter justin kevin knight lacrosse lakers lizard madison mary mother muffin murphy nirvana paris pentium phoenix
picture rainbow sandy saturn scott shannon shithead skeeter sophie special stephanie stephen steve sweetie teacher
tennis test test123 tommy topgun tristan wally william wilson 1q2w3e 654321 666666 a12345 a1b2c3d4 alpha amber
angela angie archie asdf blazer bond007 booger charles christin claire control danny david1 dennis digital disney
edward elvis felix flipper franklin frodo honda horses hunter indigo james jasper jeremy julian kelsey killer
lauren marie maryjane matrix maverick mayday mercury mitchell morgan mountain niners nothing oliver peace peanut
pearljam phantom popcorn princess psycho pumpkin purple randy rebecca reddog robert rocky roses salmon samson
sharon sierra smokey startrek steelers stimpy sunflower superman support sydney techno walter willie willow winner
ziggy zxcvbnm alaska alexis alice animal apples barbara benjamin billy blue bluebird bobby bonnie bubba camera
chocolate clark claudia cocacola compton connect cookie cruise douglas dreamer dreams duckie eagles eddie einstein
enter explorer faith family ferrari flamingo flower foxtrot francis freddy friday froggy giants gizmo global goofy
happy1 hendrix henry herman homer honey house houston iguana indiana insane inside irish ironman jake jasmin
jeanne jerry joey justice katherine kermit kitty koala larry leslie logan lucky mark martin matt minnie misty
mitch mouse nancy nascar nelson pantera parker penguin peter piano pizza prince punkin pyramid raymond robin roger
rosebud route66 royal running sadie sasha security sheena sheila skiing snapple snowball sparrow spencer spike
star stealth student sunny sylvia tamara taurus teresa theresa thunderbird tigers tony toyota travel tuesday
victory viper1 wesley whisky winnie winter wolves xyz123 zorro 123123 1234567 696969 888888 aaron abby abcdef
adidas adrian alfred arthur athena austin awesome badger bamboo beagle bears beatles beautiful beaver benny bigmac
bingo bitch blonde boogie boston brenda bright bubba1 bubbles buffy button buttons cactus candy captain carlos
caroline carrie casper catch22 chance charity charlotte cheese cheryl chloe chris1 clancy compaq conrad cooper
cooter copper cosmos cougar cracker crawford crystal curtis cyclone dance diablo dollars dookie dumbass dundee
elizabeth eric europe farmer firebird fletcher fluffy france freak1 friends fuckoff gabriel galaxy gambit garden
garfield garnet genesis genius godzilla golfer goober grace greenday groovy grover guitar hacker harry hazel
hector herbert horizon hornet howard icecream imagine impala jack janice jasmine jason1 jeanette jeffrey jenifer
jenni jesus1 jewels joker julie julie1 junior justin1 kathleen keith kelly kelly1 kennedy kevin1 knicks larry1
leonard lestat library lincoln lionking london louise lucky1 lucy maddog margaret mariposa marlboro martin1 marty
master1 mensuck mercedes metal midori mikey millie mirage molly monet money1 monica monopoly mookie moose moroni
music naomi nathan nguyen nicholas nicole nimrod october olive olivia online oscar oxford pacific painter peaches
penelope pepsi petunia philip phoenix1 photo pickle player poiuyt porsche porter puppy python quality raquel raven
remember robbie robert1 roman rugby runner russell ryan sailing sailor samantha savage scarlett school sean seven
shadow1 sheba shelby shit shoes simba simple skipper smiley snake snickers sniper snoopdog snowman sonic spitfire
sprite spunky starwars station stella stingray storm stormy stupid sunny1 sunrise surfer susan tammy tango tanya
teddy1 theboss theking thumper tina tintin tomcat trebor trevor tweety unicorn valentine valerie vanilla veronica
victor vincent viper warrior warriors weasel wheels wilbur winston wisdom wombat xavier yellow zeppelin 1111 1212
abcd1234 abcdefg abigail account adam alex1 alice1 allison alpine andre1 andrea1 angel1 anita annette antares
apache apollo aragorn arizona arnold arsenal asdfasdf asdfg asdfghjk avenger baby babydoll bailey banana barry
basket batman1 beaner beast beatrice bella bertha bigben bigdog biggles bigman binky biology bishop blondie
bluefish bobcat bosco braves brazil bruce bruno brutus buffalo bulldog bullet bullshit bunny business butch butler
butter california carebear carol carol1 carole cassie castle catalina catherine cccccc celine center champion
chanel chaos chelsea1 chester1 chicago chico christian christy church cinder colleen colorado columbia commander
connie cookies cooking corona cowboys coyote craig creative cuddles cuervo cutie daddy daisy daniel1 danielle
davids death denis derek design destiny diana diane dickhead digger dodger donna dougie dragonfly dylan eagle
eclipse electric emerald etoile excalibur express fender fiona fireman flash florida flowers foster francesco
francine francois frank french fuckface gemini general gerald germany gilbert goaway golden goldfish goose gordon
graham grant gregory gretchen gunner hannah harold harrison harvey hawkeye heaven heidi helen helena hithere
hobbit ibanez idontknow integra ireland irene isaac isabel jackass jackie jackson jaguar jamaica japan jenny1
jessie johan johnny joker1 jordan23 judith julia jumanji kangaroo karen1 kathy keepout keith1 kenneth kimberly
kingdom kitkat kramer kristen laura laurie lawrence lawyer legend liberty light lindsay lindsey lisa liverpool
lola lonely louis lovely loveme lucas madonna malcolm malibu marathon marcel maria1 mariah mariah1 marilyn mario
marvin maurice maxine maxwell meggie melanie melissa melody mexico michael1 michele midnight mike1 miracle misha
mishka molly1 monique montreal moocow moore morris mouse1 mulder nautica nellie newton nick nirvana1 nissan norman
notebook ocean olivier ollie oranges oregon orion panda pandora panther passion patricia pearl peewee pencil penny
people percy person peter1 petey picasso pierre pinkfloyd polaris police pookie1 poppy power predator preston
q1w2e3 queen queenie quentin ralph random rangers raptor reality redrum remote reynolds rhonda ricardo ricardo1
ricky river roadrunner robinhood rocknroll rocky1 ronald roxy ruthie sabrina sakura sally sampson samuel sandra
santa sapphire scarlet scorpio scott1 scottie scruffy seattle serena shanti shark shogun simon singer skull
skywalker slacker smashing smiles snowflake snuffy soccer1 soleil sonny spanky speedy spider spooky stacey star69
start steven1 stinky strawberry stuart sugar sundance superfly suzanne suzuki swimmer swimming system taffy tarzan
teddy teddybear terry theatre thunder thursday tinker tootsie tornado tracy tricia trident trojan truman trumpet
tucker turtle tyler utopia voyager warcraft warlock warren water wayne wendy williams willy winona woody woofwoof
wrangler wright xfiles xxxxxx yankees yvonne zebra zenith zigzag zombie zxc123 zxcvb 000000 007007 11111 11111111
123321 171717 181818 1a2b3c 1chris 4runner 54321 55555 6969 7777777 789456 88888888 abcd123 abcde accord active
africa airborne alfaro alicia aliens alina aline alison allen aloha alpha1 althea altima amanda1 amazing america
amour anderson andre andrew1 andromeda angels angie1 annie anything apple1 apple2 applepie april aquarius ariane
ariel arlene artemis asdf1234 ashley1 ashraf ashton asterix attila autumn avatar babes bambi barbie barney1
barrett bball beaches beanie beans beauty becca belize belle belmont benji benson bernardo berry betsy betty
bigboss bigred billy1 birdie birthday biscuit bitter blackjack blah blanche blood blowjob blowme blueeyes blues
bogart bombay boobie boots bootsie boxers brandi brent brewster bridge bronco bronte brooke brother bryan bubble
buddha budgie burton butterfly byron calendar calvin1 camel camille campbell camping cancer canela cannon carbon
carnage carolyn carrot cascade catfish cathy catwoman cecile celica change chantal charger cherry chiara chiefs
china chris123 christ1 christmas christopher chuck cindy1 cinema civic claude clueless cobain cobra cody colette
college colors colt45 confused cool corvette cosmo country crusader cunningham cupcake cynthia dagger dammit
dancer daphne darkstar darren darryl darwin deborah december deedee deeznuts delano delete demon denise denny
desert deskjet detroit devil devine devon dexter dianne diesel director dixie dodgers doggy dollar dolly dominique
domino dontknow doogie doudou downtown dragon1 driver dude dudley dutchess dwight eagle1 easter eastern edith
edmund eight element elissa ellen elliot empire enigma enterprise erin escort estelle eugene evelyn explore
family1 fatboy felipe ferguson ferret ferris fireball fishes fishie flight florida1 flowerpot forward freddie
freebird freeman frisco fritz froggie froggies frogs fucku future gabby games garcia gaston gateway george1
georgia german germany1 getout ghost gibson giselle gmoney goblin goblue gollum grandma gremlin grizzly grumpy
guess guitar1 gustavo haggis haha hailey halloween hamilton hamlet hanna hanson happy123 happyday hardcore harley1
harriet harris harvard health heart heather1 heather2 hedgehog helene hello1 hello123 hellohello hermes heythere
highland hilda hillary history hitler hobbes holiday holly honda1 hongkong hootie horse hotrod hudson hummer
huskies idiot iforget iloveu impact indonesia irina isabelle israel italia italy jackie1 jacob jakey james1
jamesbond jamie jamjam jeffrey1 jennie jenny jensen jesse jesse1 jester jethro jimbob jimmy joanna joelle john316
jordie jorge josh journey joyce jubilee jules julien juliet junebug juniper justdoit karin karine karma katerina
katie katie1 kayla keeper keller kendall kenny ketchup kings kissme kitten kittycat kkkkkk kristi kristine labtec
laddie ladybug lance laurel lawson leader leland lemon lester letter letters lexus1 libra lights lionel little
lizzy lolita lonestar longhorn looney loren lorna loser lovers loveyou lucia lucifer lucky14 maddie madmax magic1
magnum maiden maine management manson manuel marcus maria marielle marine marino marshall martha maxmax meatloaf
medical megan melina memphis mermaid miami michel michigan mickey1 microsoft mikael milano miles millenium million
miranda miriam mission mmmmmm mobile monkey1 monroe montana monty moomoo moonbeam morpheus motorola movies mozart
munchkin murray mustang1 nadia nadine napoleon nation national nestle newlife newyork1 nichole nikita nikki
nintendo nokia nomore normal norton noway nugget number9 numbers nurse nutmeg ohshit oicu812 omega openup orchid
oreo orlando packard packers paloma pancake panic parola parrot partner pascal patches patriots paula pauline
payton peach peanuts pedro1 peggy perfect perry peterpan philips phillips phone pierce pigeon pink pioneer piper1
pirate pisces playboy pluto poetry pontiac pookey popeye prayer precious prelude premier puddin pulsar pussy
pussy1 qwert qwerty12 qwertyui rabbit1 rachelle racoon rambo randy1 ravens redman redskins reggae reggie renee
renegade rescue revolution richard1 richards richmond riley ripper robby roberts rock rocket1 rockie rockon roger1
rogers roland rommel rookie rootbeer rosie rufus rusty ruthless sabbath sabina safety saint samiam sammie sammy
samsam sandi sanjose saphire sarah1 saskia sassy saturday science scooby scoobydoo scooter1 scorpion scotty scouts
search september server seven7 sexy shaggy shanny shaolin shasta shayne shelly sherry shirley shorty shotgun
sidney simba1 sinatra sirius skate skipper1 skyler slayer sleepy slider smile1 smitty smoke snakes snapper snoop
solomon sophia space sparks spartan spike1 sponge spurs squash stargate starlight stars steph1 steve1 stevens
stewart stone stranger stretch strong studio stumpy sucker suckme sultan summit sunfire sunset super superstar
surfing susan1 sutton sweden sweetpea sweety swordfish tabatha tacobell taiwan tamtam tanner target tasha tattoo
tequila terry1 texas thankyou theend thompson thrasher tiger2 timber timothy tinkerbell topcat topher toshiba
tototo travis treasure trees tricky trish triton trombone trouble trucker turbo twins tyler1 ultimate unique
united ursula vacation valley vampire vanessa venice venus vermont vicki vicky victor1 vincent1 violet violin
virgil virginia vision volley voodoo vortex waiting wanker warner water1 wayne1 webster weezer wendy1 western
white whitney whocares wildcat william1 wilma window winniethepooh wolfgang wolverine wonder xxxxxxxx yamaha
yankee yogibear yolanda yomama yvette zachary zebras zxcvbn 00000000 121212 1234qwer 131313 13579 90210 99999999
action amelie anaconda apollo13 artist asshole benoit bernard bernie bigbird blizzard bluesky bonjour caesar
cardinal carolina cesar chandler chapman charlie1 chevy chiquita chocolat coco cougars courtney dolphins dominic
donkey dusty eminem energy fearless forest forever glenn guinness hotdog indian jared jimbo johnson jojo josie
kristin lloyd lorraine lynn maxime memory mimi mirror nebraska nemesis network nigel oatmeal patton pedro planet
players portland praise psalms qwaszx raiders rambo1 rancid shawn shelley softball speedo sports ssssss steele
steph stephani sunday tiffany tigre toronto trixie undead valentin velvet viking walker watson young babygirl
pretty hottie teamo 987654321 naruto spongebob daniela princesa christ blessed single qazwsx pokemon iloveyou1
iloveyou2 fuckyou1 hahaha poop blessing blahblah blink182 123qwe trinity passw0rd google looking spirit qwerty1
onelove mylove 222222 ilovegod football1 loving emmanuel 1q2w3e4r red123 blabla 112233 hallo spiderman simpsons
monster november brooklyn poopoo darkness 159753 pineapple chester 1qaz2wsx drowssap monkey12 wordpass q1w2e3r4
coolness 11235813 something alexandra estrella miguel iloveme sayang princess1 555555 999999 alejandro brittany
alejandra tequiero antonio 987654 00000 fernando corazon cristina kisses myspace rebelde babygurl alyssa mahalkita
gabriela pictures hellokitty babygirl1 angelica mahalko mariana eduardo andres ronaldo inuyasha adriana celtic
samsung angelo 456789 sebastian karina hotmail 0123456789 barcelona cameron slipknot cutiepie 50cent bonita
maganda babyboy natalie cuteako javier 789456123 123654 bowwow portugal 777777 volleyball january cristian bianca
chrisbrown 101010 sweet panget benfica love123 lollipop camila qwertyuiop harrypotter ihateyou christine lorena
andreea charmed rafael brianna aaliyah johncena lovelove gangsta 333333 hiphop mybaby sergio metallica myspace1
babyblue badboy fernanda westlife sasuke steaua roberto slideshow asdfghjkl santiago jayson 5201314 jerome gandako
gatita babyko 246810 sweetheart chivas alberto valeria nicole1 12345678910 leonardo jayjay liliana sexygirl 232323
amores anthony1 bitch1 fatima miamor lover lalala 252525 skittles colombia 159357 manutd 123456a britney katrina
christina pasaway mahal tatiana cantik 0123456 teiubesc 147258369 natalia francisco amorcito paola angelito
manchester mommy1 147258 amigos marlon linkinpark 147852 diego 444444 iverson andrei justine frankie pimpin
fashion bestfriend england hermosa 456123 102030 sporting hearts potter iloveu2 number1 212121 truelove jayden
savannah hottie1 ganda scotland ilovehim shakira estrellita brandon1 sweets familia love12 omarion monkeys
loverboy elijah ronnie mamita 999999999 broken rodrigo westside mauricio amigas preciosa shopping flores isabella
martinez elaine friendster cheche gracie connor valentina darling santos joanne fuckyou2 pebbles sunshine1
gangster gloria darkangel bettyboop jessica1 cheyenne dustin iubire a123456 purple1 bestfriends inlove batista
karla chacha marian sexyme pogiako jordan1 010203 daddy1 daddysgirl billabong pinky erika skater nenita tigger1
gatito lokita maldita buttercup bambam glitter 123789 sister zacefron tokiohotel loveya lovebug bubblegum marissa
cecilia lollypop nicolas puppies ariana chubby sexybitch roxana mememe susana baller hotstuff carter babylove
angelina playgirl sweet16 012345 bhebhe marcos loveme1 milagros lilmama beyonce lovely1 catdog armando margarita
151515 loves 202020 gerard undertaker amistad capricorn delfin cheerleader password2 lizzie matthew1 enrique
badgirl 141414 dancing cuteme amelia skyline angeles janine carlitos justme legolas michelle1 cinderella
jesuschrist ilovejesus tazmania tekiero thebest princesita lucky7 jesucristo buddy1 regina myself lipgloss jazmin
rosita chichi pangit mierda 741852963 hernandez arturo silvia melvin celeste pussycat gorgeous honeyko mylife
babyboo loveu lupita panthers hollywood alfredo musica hawaii sparkle kristina sexymama crazy scarface 098765
hayden micheal 242424 0987654321 marisol jeremiah mhine isaiah lolipop butterfly1 xbox360 madalina anamaria
yourmom jasmine1 bubbles1 beatriz diamonds friendship sweetness desiree 741852 hannah1 bananas julius leanne
marie1 lover1 twinkle february bebita 87654321 twilight imissyou pollito ashlee cookie1 147852369 beckham simone
nursing torres damian 123123123 joshua1 babyface dinamo mommy juliana cassandra redsox gundam 0000 ou812 dave golf
molson newpass thx1138 coke foobar fish fred help ncc1701d newuser none duck duke floyd guest kingfish micro
telecom test1 7777 absolut babylon5 backup bill bird33 deliver fire flip galileo gopher hansolo jane passwd phil
phish porsche911 rain sergei training truck video volvo 1969 5683 alexandr catalog challenge clipper coltrane
cyrano dawn dean deutsch dilbert email export ford fountain frog gabriell garlic goforit grateful hoops lady
ledzep mailman mantra market mazda1 metallic ncc1701e nesbitt open pete quest republic research supra tara testing
xanadu xxxx zaphod zeus 0007 1022 10sne1 1973 1978 2000 2222 3bears broadway abacab abcd acropolis anders avenir
basil bass beer bliss blowfish boss bridges buck bugsy bull cannondale canon catnip chip civil content cook
cordelia crack1 cyber daisie dark1 database deadhead denali depeche dickens emmitt entropy farout farside feedback
fidel firenze fish1 fletch fool fozzie gargoyle gasman gold graphic hell image intern intrepid jeff jkl123 joel
johanna1 kidder king kirk kris lambda leon logical lorrie major mariner mark1 media merlot midway mine mmouse moon
mopar mortimer nermal nina olsen opera overkill pacers packer picard polar polo primus prometheus public radio
rastafarian reptile robotech rodeo rolex rouge ruby salasana scarecrow scout scuba1 sergey skibum skunk sound
starter sting1 sunbird tbird teflon temporal terminal thejudge time toby today tokyo tree trout vader valhalla
windsurf wolf wolf1 xcountry yoda yukon 1213 1214 1225 1313 1818 1975 1977 1991 1kitty 2001 2020 2112 2kids 4444
5050 57chevy 7dwarfs animals bismillah esther hershey jersey madeline sterling aaaa aardvark abbott acura admin
admin1 adrock aerobics agent airwolf alien allegro allstate altamira altima1 anne anneli aptiva arrow asdflkj
assmunch baraka barnyard bart bartman beasty beavis1 bebe belgium beowulf beryl best bharat bichon bigal biker
bilbo bills bimmer biochem birdy blinds blitz bluejean bogey bogus boulder bourbon boxer brain branch britain
broker bucks buffett bugs bulls burns buzz c00per calgary camay carl cement cessna chad chainsaw chameleon chang
chess chinook chouette chronos cicero circuit cirque cirrus clapton clarkson class claudel cleo cliff clock color
comet concept concorde coolbean corky cornflake corwin cows crescent cross crowley cthulhu cunt current cutlass
daedalus dagger1 daily dale dana daytek dead decker dharma dillweed dipper disco dixon doitnow doors dork doug
dutch effie ella elsie engage eric1 ernie1 escort1 excel faculty fairview faust fenris finance first fishhead
flanders fleurs flute flyboy flyer franka frederic free front242 frontier fugazi funtime gaby gaelic gambler
gammaphi garfunkel garth gary gateway2 gator1 gibbons gigi gilgamesh goat godiva goethe gofish good gramps gravis
gray greed greg greg1 greta gretzky guido gumby h2opolo hamid hank hawkeye1 health1 hello8 help123 helper homerj
hoosier hope huang hugo hydrogen ib6ub9 insight instructor integral iomega iris izzy jazz jean jeepster jetta1
joanie josee julia2 jumbo jump justice4 kalamazoo kali kate kerala kids kiwi kleenex kombat lamer laser laserjet
lassie1 leblanc legal life lions logger logos loislane loki longer lori lost lotus macha macross madoka makeitso
mallard marc math mattingly mechanic meister mercer merde merrill michal michou mickel minou mobydick modem mojo
montana3 montrose motor mowgli mulder1 muscle neil neutrino newaccount nicklaus nightshade nightwing nike none1
nopass nouveau novell oaxaca obiwan obsession orville otter ozzy packrat paint papa paradigm pass pavel peterk
phialpha phishy piano1 pianoman pianos pipeline plato play poetic print printing provider qqq111 quebec qwer racer
racerx radar rafiki raleigh rasta1 redcloud redfish redwing redwood reed rene reznor rhino ripple rita robocop
robotics roche roni rossignol rugger safety1 saigon satori saturn5 schnapps scotch scuba secret3 seeker services
shanghai shazam shelter sigmachi signal signature simsim skydive slick smegma smiths smurfy snow sober1 sonics
sony spazz sphynx spock spoon spot sprocket starbuck steel stephi sting stocks storage strat strato stud student2
susanna swanson swim switzer system5 tbone talon tarheel tata tazdevil tester testtest thisisit thorne tightend
tool total toucan transfer transit transport trapper trash trophy tucson turbo2 unity upsilon vedder vette vikram
virago visual volcano walden waldo walleye webmaster wedge whale1 whit whoville wibble will wombat1 word world
xxx123 zack zepplin zoltan zoomer 123go 21122112 5555 windows angus aspen bird booster byteme cats changeit
christia christoph classroom cloclo corrado dasha fiction french1 fubar gator gilles gocougs hilbert hola home
judy koko lulu macintosh mailer mars meow ne1469 niki paul politics pomme property ruth sales salut scrooge skidoo
spain surf sylvie symbol forum rotimi saved 2580 1998 1928 info netware tech doom 1911 1948 1996 5252 champs bach
crow draft hal9000 herzog huey jethrotull jussi mail miki nicarao snowski 1316 1412 1430 1952 1953 1955 1956 1960
1964 1qw23e 2200 2252 3010 3112 4788 6262 bastard celtics darkman figaro fortune geronimo janet mellon paladin
vernon waterloo aki123 aqua aylmer beta bozo chat chinacat cora courier dogbert eieio elina1 funguy fuzz ggeorge
glider1 gone hawk heikki histoire hugh if6was9 ingvar jedi jimi juhani khan lima midvale neko nesbit nexus6 nisse
notta1 park pole pope pyro reliant rush seoul skip stan suzy testi thelorax tika toto1 wind xmen demo doom2
homebrew m1911a1 ne1410s ne14a69 zhongguo sample123 0852 basf informix majordomo news temp trek raistlin opus plus
visa 1332 1950 3141 3533 4055 4854 6301 bonzo gretel michel1 noriko sidekick sverige swoosh woodrow ayelet barn
betacam boat cuda hallowell haro hosehead ilmari irmeli j1l2t3 kcin kerrya kissa2 leaf lissabon mart matti1 mech
morecats paagal performa prof ratio ship slip stivers tapani targas test2 test3 tula unix user1 xanth 1701d allo
dirk newcourt nite notused
`
  .trim()
  .split(/\s+/);
