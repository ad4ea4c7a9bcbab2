package ball

import "math/big"

// Pi returns π with a radius of about 2^-prec.
func Pi(prec uint) Real {
	prec = precision(prec)
	return fixedBall(piFixed(prec+4), int(prec+4), constantError, prec)
}

// Log2 returns log 2 with a radius of about 2^-prec.
func Log2(prec uint) Real {
	prec = precision(prec)
	return fixedBall(log2Fixed(prec+4), int(prec+4), constantError, prec)
}

// constantError bounds the errors of piFixed and log2Fixed in units.
const constantError = 2

// tableBits is the number of bits behind the point in the tables below, which
// serve without computation and without a cache what is asked for every day.
// Beyond it, π and log 2 are computed anew each time.
const tableBits = 5120

var piTable, log2Table = fromHex(piHex), fromHex(log2Hex)

func fromHex(s string) *big.Int {
	n, _ := new(big.Int).SetString(s, 16)
	return n
}

// piFixed returns π·2^w within constantError.
func piFixed(w uint) *big.Int {
	if w <= tableBits {
		return new(big.Int).Rsh(piTable, tableBits-w)
	}
	const guard = 32
	return new(big.Int).Rsh(chudnovsky(w+guard), guard)
}

// log2Fixed returns log 2·2^w within constantError.
func log2Fixed(w uint) *big.Int {
	if w <= tableBits {
		return new(big.Int).Rsh(log2Table, tableBits-w)
	}
	const guard = 32
	return new(big.Int).Rsh(machinLog2(w+guard), guard)
}

// chudnovsky returns π·2^w within 2^16 units, by the series of D. and G.
// Chudnovsky (1988) and binary splitting: 1/π = 12 Σ (-1)^k (6k)! (13591409 +
// 545140134k) / ((3k)! (k!)³ 640320^(3k+3/2)). A term gives more than 47 bits.
func chudnovsky(w uint) *big.Int {
	_, q, t := chudnovskySplit(0, int64(w/47)+2)
	root := new(big.Int).Lsh(big.NewInt(10005), 2*w)
	root.Sqrt(root)
	root.Mul(root, q.Mul(q, big.NewInt(426880)))
	return root.Quo(root, t)
}

// chudnovskySplit returns P, Q, T of the terms a ≤ k < b.
func chudnovskySplit(a, b int64) (p, q, t *big.Int) {
	if b-a == 1 {
		p, q = big.NewInt(1), big.NewInt(1)
		if a > 0 {
			p.Mul(big.NewInt(6*a-5), big.NewInt((2*a-1)*(6*a-1)))
			q.Mul(big.NewInt(a*a), big.NewInt(a*10939058860032000))
			if a > 800 { // a·640320³/24 leaves the word
				q.Mul(big.NewInt(a*a*a), big.NewInt(10939058860032000))
			}
		}
		t = new(big.Int).Mul(p, big.NewInt(13591409+545140134*a))
		if a&1 != 0 {
			t.Neg(t)
		}
		return p, q, t
	}
	m := (a + b) / 2
	p1, q1, t1 := chudnovskySplit(a, m)
	p2, q2, t2 := chudnovskySplit(m, b)
	t1.Mul(t1, q2)
	t2.Mul(t2, p1)
	return p1.Mul(p1, p2), q1.Mul(q1, q2), t1.Add(t1, t2)
}

// machinLog2 returns log 2·2^w within 2^16 units:
// log 2 = 18 artanh(1/26) - 2 artanh(1/4801) + 8 artanh(1/8749).
func machinLog2(w uint) *big.Int {
	sum := new(big.Int)
	for _, part := range [...]struct{ c, k int64 }{{18, 26}, {-2, 4801}, {8, 8749}} {
		// Terms n and beyond are below k^-2n < 2^-w.
		bits := uint(bitLen(uint64(part.k*part.k)) - 1)
		_, d, k, t := artanhSplit(0, int64(w/bits)+1, part.k*part.k)
		t.Lsh(t.Mul(t, big.NewInt(part.c)), w)
		sum.Add(sum, t.Quo(t, d.Mul(d, k).Mul(d, big.NewInt(part.k))))
	}
	return sum
}

// artanhSplit returns T, D, K with Σ 1/((2j+1) k2^(j-a)) = T/(D·K) over a ≤ j < b.
func artanhSplit(a, b, k2 int64) (n int64, d, k, t *big.Int) {
	if b-a == 1 {
		return 1, big.NewInt(2*a + 1), big.NewInt(k2), big.NewInt(k2)
	}
	m := (a + b) / 2
	_, d1, k1, t1 := artanhSplit(a, m, k2)
	_, d2, kk2, t2 := artanhSplit(m, b, k2)
	t1.Mul(t1.Mul(t1, d2), kk2)
	t2.Mul(t2, d1)
	return b - a, d1.Mul(d1, d2), k1.Mul(k1, kk2), t1.Add(t1, t2)
}

const piHex = "" +
	"3243f6a8885a308d313198a2e03707344a4093822299f31d0082efa98ec4e6c89452821e638d01377be5466cf34e90c6cc0a" +
	"c29b7c97c50dd3f84d5b5b54709179216d5d98979fb1bd1310ba698dfb5ac2ffd72dbd01adfb7b8e1afed6a267e96ba7c904" +
	"5f12c7f9924a19947b3916cf70801f2e2858efc16636920d871574e69a458fea3f4933d7e0d95748f728eb658718bcd58821" +
	"54aee7b54a41dc25a59b59c30d5392af26013c5d1b023286085f0ca417918b8db38ef8e79dcb0603a180e6c9e0e8bb01e8a3" +
	"ed71577c1bd314b2778af2fda55605c60e65525f3aa55ab945748986263e8144055ca396a2aab10b6b4cc5c341141e8cea15" +
	"486af7c72e993b3ee1411636fbc2a2ba9c55d741831f6ce5c3e169b87931eafd6ba336c24cf5c7a325381289586773b8f489" +
	"86b4bb9afc4bfe81b6628219361d809ccfb21a991487cac605dec8032ef845d5de98575b1dc262302eb651b8823893e81d39" +
	"6acc50f6d6ff383f442392e0b4482a484200469c8f04a9e1f9b5e21c66842f6e96c9a670c9c61abd388f06a51a0d2d8542f6" +
	"8960fa728ab5133a36eef0b6c137a3be4ba3bf0507efb2a98a1f1651d39af017666ca593e82430e888cee8619456f9fb47d8" +
	"4a5c33b8b5ebee06f75d885c12073401a449f56c16aa64ed3aa62363f77061bfedf72429b023d37d0d724d00a1248db0fead" +
	"349f1c09b075372c980991b7b25d479d8f6e8def7e3fe501ab6794c3b976ce0bd04c006bac1a94fb6409f60c45e5c9ec2196" +
	"a246368fb6faf3e6c53b51339b2eb3b52ec6f6dfc511f9b30952ccc814544af5ebd09bee3d004de334afd660f2807192e4bb" +
	"3c0cba85745c8740fd20b5f39b9d3fbdb5579c0bd1a60320ad6a100c6402c7279679f25fefb1fa3cc"

const log2Hex = "" +
	"b17217f7d1cf79abc9e3b39803f2f6af40f343267298b62d8a0d175b8baafa2be7b876206debac98559552fb4afa1b10ed2e" +
	"ae35c138214427573b291169b8253e96ca16224ae8c51acbda11317c387eb9ea9bc3b136603b256fa0ec7657f74b72ce87b1" +
	"9d6548caf5dfa6bd38303248655fa1872f20e3a2da2d97c50f3fd5c607f4ca11fb5bfb90610d30f88fe551a2ee569d6dfc1e" +
	"fa157d2e23de1400b39617460775db8990e5c943e732b479cd33cccc4e659393514c4c1a1e0bd1d6095d25669b333564a337" +
	"6a9c7f8a5e148e82074db6015cfe7aa30c480a5417350d2c955d5179b1e17b9dae313cdb6c606cb1078f735d1b2db31b5f50" +
	"b5185064c18b4d162db3b365853d7598a1951ae273ee5570b6c68f96983496d4e6d330af889b44a02554731cdc8ea17293d1" +
	"228a4ef98d6f5177fbcf0755268a5c1f9538b98261affd446b1ca3cf5e9222b88c66d3c5422183edc99421090bbb16faf3d9" +
	"49f236e02b20cee886b905c128d53d0bd2f9621363196af503020060e49908391a0c57339ba2beba7d052ac5b61cc4e9207c" +
	"ef2f0ce2d7373958d7622658901e646a95184460dc4e7487156e0c292413d5e361c1696dd24aaebd473826fda0c238b90ab1" +
	"11bbbd67c724972cd18bfbbd9d426c472096e76115c05f6f7cebac9f45aececb72f19c38339d8f6826250dea891ef07afff3" +
	"a892374e175eb4afc8daadd885db6ab03a49bd0dc0b1b31d8a0e23fac5e5767df95884e06425a41526fac51c3ea8449fe8f7" +
	"0edd062b1a63a6c4c60c52ab33161e238438897a39ce78b63c9f364f5b8aef22ec2fee6e0850eca42d06fb0c75df5497e00c" +
	"554b03d7d2874a000ca8f58d94f0341cbe2ec92156c9f949db4a9316f281501e53daec3f64f1b783"
