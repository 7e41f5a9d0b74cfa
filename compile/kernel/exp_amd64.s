#include "textflag.h"

DATA low7<>+0(SB)/8, $127
DATA low7<>+8(SB)/8, $127
DATA low7<>+16(SB)/8, $127
DATA low7<>+24(SB)/8, $127
GLOBL low7<>(SB), RODATA|NOPTR, $32

// func expAVX2(dst, src *float64, groups int, table *uint64, constants *float64) int
TEXT ·expAVX2(SB), NOSPLIT, $0-48
	MOVQ dst+0(FP), DI
	MOVQ src+8(FP), SI
	MOVQ groups+16(FP), CX
	MOVQ table+24(FP), R8
	MOVQ constants+32(FP), R9
	XORQ DX, DX
	VMOVUPD 64(R9), Y12  // stepsPerUnit
	VMOVUPD 96(R9), Y13  // roundBits
	VMOVUPD 128(R9), Y14 // stepHi
	VMOVUPD 160(R9), Y15 // stepLo

loop:
	TESTQ CX, CX
	JZ    done
	VMOVUPD (SI), Y0

	// all four between expLow and expHigh?
	VCMPPD    $0x1E, (R9), Y0, Y1
	VCMPPD    $0x11, 32(R9), Y0, Y2
	VANDPD    Y1, Y2, Y1
	VMOVMSKPD Y1, AX
	CMPL      AX, $15
	JNE       done

	VMULPD Y12, Y0, Y1
	VADDPD Y13, Y1, Y1 // shifted
	VSUBPD Y13, Y1, Y2 // whole
	VMULPD Y14, Y2, Y3
	VSUBPD Y3, Y0, Y3
	VMULPD Y15, Y2, Y4
	VSUBPD Y4, Y3, Y3  // r

	// expTable[steps%128]: bits and tail lie side by side
	VPAND      low7<>(SB), Y1, Y5
	VPADDQ     Y5, Y5, Y5
	VPCMPEQQ   Y6, Y6, Y6
	VPGATHERQQ Y6, (R8)(Y5*8), Y7
	VPCMPEQQ   Y6, Y6, Y6
	VGATHERQPD Y6, 8(R8)(Y5*8), Y8
	VPSLLQ     $45, Y1, Y9
	VPADDQ     Y9, Y7, Y7 // scale

	VMULPD  Y3, Y3, Y9          // r2
	VMULPD  224(R9), Y3, Y10
	VADDPD  192(R9), Y10, Y10   // 1/2 + r/6
	VMULPD  288(R9), Y3, Y11
	VADDPD  256(R9), Y11, Y11   // 1/24 + r/120
	VADDPD  Y3, Y8, Y8          // tail + r
	VMULPD  Y10, Y9, Y10
	VADDPD  Y10, Y8, Y8
	VMULPD  Y9, Y9, Y9
	VMULPD  Y11, Y9, Y11
	VADDPD  Y11, Y8, Y8
	VMULPD  Y8, Y7, Y8
	VADDPD  Y8, Y7, Y8
	VMOVUPD Y8, (DI)

	ADDQ $32, SI
	ADDQ $32, DI
	ADDQ $4, DX
	DECQ CX
	JMP  loop

done:
	VZEROUPPER
	MOVQ DX, ret+40(FP)
	RET

// func cpuid(leaf, sub uint32) (a, b, c, d uint32)
TEXT ·cpuid(SB), NOSPLIT, $0-24
	MOVL leaf+0(FP), AX
	MOVL sub+4(FP), CX
	CPUID
	MOVL AX, a+8(FP)
	MOVL BX, b+12(FP)
	MOVL CX, c+16(FP)
	MOVL DX, d+20(FP)
	RET

// func xgetbv() uint32
TEXT ·xgetbv(SB), NOSPLIT, $0-4
	XORL CX, CX
	XGETBV
	MOVL AX, ret+0(FP)
	RET
